/// <reference types="astro/client" />

import type { Actor } from '@/server/actor';

declare global {
  namespace App {
    interface Locals {
      /** Who is signed in, found out by the middleware; undefined if nobody is. */
      actor: Actor | undefined;
    }
  }
}
