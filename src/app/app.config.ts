import { provideHttpClient, withXsrfConfiguration } from '@angular/common/http';
import {
  type ApplicationConfig,
  provideBrowserGlobalErrorListeners,
  provideZonelessChangeDetection,
} from '@angular/core';
import { MAT_FORM_FIELD_DEFAULT_OPTIONS } from '@angular/material/form-field';
import {
  provideRouter,
  TitleStrategy,
  withComponentInputBinding,
  withDisabledInitialNavigation,
  withPreloading,
} from '@angular/router';
import { APP_ROUTES } from './app.routes';
import { DeskPreloading } from './core/desk-preloading';
import { PageTitle } from './core/page-title';
import { provideIcons } from './ui/icons';

export const appConfig: ApplicationConfig = {
  providers: [
    provideZonelessChangeDetection(),
    provideBrowserGlobalErrorListeners(),
    provideHttpClient(
      withXsrfConfiguration({ cookieName: 'XSRF-TOKEN', headerName: 'X-XSRF-TOKEN' }),
    ),
    // The first address is opened once it is known who is signed in; `App` does it.
    provideRouter(
      APP_ROUTES,
      withDisabledInitialNavigation(),
      withComponentInputBinding(),
      withPreloading(DeskPreloading),
    ),
    { provide: TitleStrategy, useClass: PageTitle },
    provideIcons(),
    // Filled fields hide their label at the board's density.
    {
      provide: MAT_FORM_FIELD_DEFAULT_OPTIONS,
      useValue: { appearance: 'outline', subscriptSizing: 'dynamic' },
    },
  ],
};
