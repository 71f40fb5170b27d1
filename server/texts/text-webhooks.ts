import { Router } from 'express';
import type { Context } from '../context';

export function textWebhooks(_context: Context): Router {
  return Router();
}
