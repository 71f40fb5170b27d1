import { bootstrapApplication } from '@angular/platform-browser';
import { App } from './app/app';
import { appConfig } from './app/app.config';
import { applyStoredTheme } from './app/core/theme';

applyStoredTheme(document.documentElement);
bootstrapApplication(App, appConfig).catch((error: unknown) => console.error(error));
