import { type Routes } from '@angular/router';

/** The pages. Each is fetched when it is first opened, and names itself in the title. */
export const routes: Routes = [
  {
    path: '',
    pathMatch: 'full',
    title: 'Skewline: one order, where there is one',
    loadComponent: () => import('./about/about').then((file) => file.About),
  },
  { path: '**', title: 'No such page: Skewline', loadComponent: () => import('./about/no-such-page').then((file) => file.NoSuchPage) },
];
