import { z } from 'zod'

export const idShape = z.number().int().positive()
export const nameShape = z.string().trim().min(1).max(120)
export const noteShape = z.string().max(4000)
export const atMsShape = z.number().int().nonnegative()
