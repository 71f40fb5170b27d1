import type { Routes } from '@angular/router';
import { homeGuard, roleGuard, signedInGuard } from './core/role-guard';

const DESK = roleGuard('dispatcher', 'manager', 'owner');
const OFFICE = roleGuard('manager', 'owner');
const TECHNICIAN = roleGuard('technician');

export const APP_ROUTES: Routes = [
  {
    path: 'sign-in',
    title: 'Sign in',
    loadComponent: () => import('./sign-in/sign-in-page').then((m) => m.SignInPage),
  },
  {
    path: 'password',
    title: 'Change password',
    canActivate: [signedInGuard],
    loadComponent: () => import('./sign-in/password-page').then((m) => m.PasswordPage),
  },
  {
    path: 'board',
    title: 'Board',
    canActivate: [DESK],
    loadComponent: () => import('./board/board-page').then((m) => m.BoardPage),
  },
  {
    path: 'routes',
    title: 'Routes',
    canActivate: [DESK],
    loadComponent: () => import('./routes/routes-page').then((m) => m.RoutesPage),
  },
  {
    path: 'messages',
    title: 'Messages',
    canActivate: [DESK],
    loadComponent: () => import('./messages/messages-page').then((m) => m.MessagesPage),
  },
  {
    path: 'night-logs',
    title: 'Night logs',
    canActivate: [DESK],
    loadComponent: () => import('./night-log/night-log-page').then((m) => m.NightLogPage),
  },
  {
    path: 'drain',
    title: 'Drain',
    canActivate: [OFFICE],
    loadComponent: () => import('./drain/drain-page').then((m) => m.DrainPage),
  },
  {
    path: 'office',
    title: 'Office',
    canActivate: [OFFICE],
    loadComponent: () => import('./office/office-page').then((m) => m.OfficePage),
  },
  {
    path: 'day',
    title: 'Today',
    canActivate: [TECHNICIAN],
    loadComponent: () => import('./day/day-page').then((m) => m.DayPage),
  },
  { path: '**', canActivate: [homeGuard], children: [] },
];
