import { z } from 'zod'
import { command, query } from './operation.ts'
import {
  assumptionsShape,
  budgetShape,
  budgetViewShape,
  ceilingShape,
  constraintCostsShape,
  improvedChoiceShape,
  orderNameShape,
  smallestShape,
} from './shapes/budget.ts'
import { bytesColumn, float64Column } from './shapes/columns.ts'
import { idShape, nameShape, noteShape } from './shapes/ids.ts'
import {
  fieldErrorShape,
  fieldShape,
  fieldValuesShape,
  limitsShape,
  productShape,
  testerShape,
} from './shapes/model.ts'
import { moneyViewShape } from './shapes/money.ts'
import { netlistInspectionShape, netlistRevisionShape, testPinShape } from './shapes/netlist.ts'
import { patternInspectionShape, patternSetRevisionShape } from './shapes/pattern-set.ts'
import { projectShape, recentProjectShape } from './shapes/project.ts'
import { runShape } from './shapes/run.ts'
import { taskShape } from './shapes/task.ts'

const nothing = z.object({})
const byId = z.object({ id: idShape })
const cutOfRun = z.object({
  runId: idShape,
  order: orderNameShape,
  cut: z.number().int().nonnegative(),
  assumptions: assumptionsShape,
})
/** A deletion can be taken back with its token while the project stays open. */
const undo = z.object({ undoToken: z.string() })

const settings = z.object({
  theme: z.enum(['system', 'light', 'dark']),
  /** Single letters act as shortcuts while no field has the focus. */
  singleKeys: z.boolean(),
  /** Zoom of the whole window, 1 = 100 %. */
  zoom: z.number().min(0.5).max(3),
})

/** Every operation of the application, once; each door offers all of them. */
export const operations = {
  'app.info': query(
    nothing,
    z.object({
      version: z.string(),
      engine: z.string(),
      door: z.enum(['window', 'browser', 'command line']),
      projectFolder: z.string(),
    }),
  ),
  'settings.get': query(nothing, settings),
  'settings.set': command(settings.partial(), settings),

  /** Hands a file's bytes to the host, which keeps them until they are used or the session ends. */
  'files.add': command(
    z.object({ name: z.string().min(1).max(260), bytes: bytesColumn }),
    z.object({ fileId: z.string(), name: z.string(), sizeBytes: z.number() }),
  ),
  'files.drop': command(z.object({ fileIds: z.array(z.string()) }), nothing),

  'projects.recent': query(nothing, z.object({ projects: z.array(recentProjectShape) })),
  'projects.current': query(nothing, z.object({ project: projectShape.nullable() })),
  'projects.create': command(z.object({ name: nameShape, folder: z.string().optional() }), projectShape),
  'projects.open': command(z.object({ path: z.string().min(1) }), projectShape),
  'projects.close': command(nothing, nothing),
  'projects.forget': command(z.object({ path: z.string() }), nothing),
  /** Builds the demo project (or opens it where it is already there). */
  'projects.openDemo': command(nothing, projectShape),

  'products.get': query(
    byId,
    z.object({
      product: productShape,
      netlists: z.array(netlistRevisionShape),
      patternSets: z.array(patternSetRevisionShape),
      runs: z.array(runShape),
      budgets: z.array(budgetShape),
    }),
  ),
  'products.create': command(z.object({ name: nameShape }), productShape),
  'products.update': command(
    z.object({
      id: idShape,
      name: nameShape.optional(),
      note: noteShape.optional(),
      values: fieldValuesShape.optional(),
      limits: limitsShape.optional(),
      testerId: idShape.nullable().optional(),
    }),
    z.object({ product: productShape, fieldErrors: z.array(fieldErrorShape) }),
  ),
  'products.delete': command(byId, undo),
  /** The fields of product.json and tester.json, for forms. */
  'fields.get': query(nothing, z.object({ product: z.array(fieldShape), tester: z.array(fieldShape) })),

  'testers.list': query(nothing, z.object({ testers: z.array(testerShape) })),
  'testers.create': command(z.object({ name: nameShape, values: fieldValuesShape.default({}) }), testerShape),
  'testers.update': command(
    z.object({
      id: idShape,
      name: nameShape.optional(),
      note: noteShape.optional(),
      values: fieldValuesShape.optional(),
    }),
    z.object({ tester: testerShape, fieldErrors: z.array(fieldErrorShape) }),
  ),
  'testers.delete': command(byId, undo),

  'undo.restore': command(z.object({ undoToken: z.string() }), nothing),

  /** Reads netlist files without saving anything; the result stays with the host until saved or replaced. */
  'netlists.inspect': command(
    z.object({
      fileIds: z.array(z.string()).min(1),
      libraryFileIds: z.array(z.string()).default([]),
      top: z.string().nullable().default(null),
      testPins: z.array(testPinShape).default([]),
      assumeScanned: z.boolean().default(false),
    }),
    netlistInspectionShape,
  ),
  'netlists.save': command(
    z.object({ productId: idShape, inspectionId: z.string(), name: nameShape, note: noteShape.default('') }),
    netlistRevisionShape,
  ),
  'netlists.update': command(
    z.object({ id: idShape, name: nameShape.optional(), note: noteShape.optional() }),
    netlistRevisionShape,
  ),
  'netlists.delete': command(byId, undo),

  'patternSets.inspect': command(
    z.object({ netlistId: idShape, fileIds: z.array(z.string()).min(1) }),
    patternInspectionShape,
  ),
  'patternSets.save': command(
    z.object({ productId: idShape, inspectionId: z.string(), name: nameShape, note: noteShape.default('') }),
    patternSetRevisionShape,
  ),
  'patternSets.update': command(
    z.object({ id: idShape, name: nameShape.optional(), note: noteShape.optional() }),
    patternSetRevisionShape,
  ),
  'patternSets.delete': command(byId, undo),

  /** Queues a coverage run and answers at once; progress comes as task and changed events. */
  'runs.start': command(
    z.object({
      netlistId: idShape,
      patternSetId: idShape,
      detectionLimit: z.number().int().min(0).default(0),
    }),
    runShape,
  ),
  'runs.cancel': command(byId, runShape),
  'runs.resume': command(byId, runShape),
  'runs.delete': command(byId, undo),
  /** Faults detected after each pattern that a run has done since the program began; null before its first segment. */
  'runs.curve': query(byId, z.object({ detected: float64Column.nullable() })),

  /** Orders, figures at every cut and markers of one finished run. */
  'budgets.view': query(
    z.object({ runId: idShape, orders: z.array(orderNameShape).min(1), assumptions: assumptionsShape }),
    z.object({ view: budgetViewShape.nullable(), fieldErrors: z.array(fieldErrorShape) }),
  ),
  /** Proves a ceiling for every number of patterns; a task with progress that can be cancelled, its result is kept. */
  'budgets.ceiling': command(z.object({ runId: idShape, assumptions: assumptionsShape }), ceilingShape),
  /** Looks (longer) for the smallest complete set, which views show from then on; a task that can be cancelled. */
  'budgets.smallest': command(
    z.object({
      runId: idShape,
      assumptions: assumptionsShape,
      seconds: z.number().min(1).max(3600).default(30),
    }),
    smallestShape,
  ),
  /** Improves the choice at a cut within its patterns or its tester cycles; a task that can be cancelled. */
  'budgets.improve': command(
    cutOfRun.extend({
      cut: z.number().int().positive(),
      within: z.enum(['patterns', 'cycles']).default('patterns'),
      seconds: z.number().min(1).max(3600).default(20),
    }),
    improvedChoiceShape,
  ),
  'budgets.constraintCosts': query(cutOfRun, constraintCostsShape),
  'budgets.save': command(
    cutOfRun.extend({
      productId: idShape,
      name: nameShape,
      note: noteShape.default(''),
    }),
    budgetShape,
  ),
  'budgets.update': command(
    z.object({
      id: idShape,
      name: nameShape.optional(),
      note: noteShape.optional(),
      inUse: z.boolean().optional(),
    }),
    budgetShape,
  ),
  'budgets.delete': command(byId, undo),

  /** What a cut costs a year, how firm that is, and what other equipment would change. */
  'budgets.money': query(cutOfRun, moneyViewShape),

  /** Faults that a cut loses against the whole set, by block and one by one. */
  'faults.lost': query(
    cutOfRun.extend({
      /** Only faults of this block (a name prefix that ends in `/`); null for all. */
      block: z.string().nullable().default(null),
      first: z.number().int().nonnegative().default(0),
      count: z.number().int().min(1).max(1000).default(200),
    }),
    z.object({
      blocks: z.array(
        z.object({ block: z.string(), faults: z.number(), detected: z.number(), lost: z.number() }),
      ),
      lost: z.number(),
      rows: z.array(
        z.object({
          fault: z.string(),
          block: z.string(),
          weight: z.number(),
          /** The cheapest pattern that brings it back, numbered from 1, its position in the order, and its cycles. */
          pattern: z.number(),
          position: z.number(),
          cycles: z.number(),
        }),
      ),
    }),
  ),

  /** A report or a pattern file of a cut, as bytes with a proposed file name. */
  'exports.make': command(
    cutOfRun.extend({
      format: z.enum(['html', 'pdf', 'xlsx', 'csv', 'vectors', 'patterns-csv', 'stil']),
    }),
    z.object({
      fileName: z.string(),
      mediaType: z.string(),
      bytes: bytesColumn,
      warnings: z.array(z.string()),
    }),
  ),

  'tasks.list': query(nothing, z.object({ tasks: z.array(taskShape) })),
  'tasks.cancel': command(z.object({ id: z.string() }), nothing),
} as const

export type Operations = typeof operations
export type OperationName = keyof Operations
export type InputOf<N extends OperationName> = z.input<Operations[N]['input']>
export type ParsedInputOf<N extends OperationName> = z.output<Operations[N]['input']>
export type OutputOf<N extends OperationName> = z.output<Operations[N]['output']>
export type Settings = z.infer<typeof settings>
