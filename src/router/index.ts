import { nextTick } from 'vue';
import { createRouter, createWebHistory } from 'vue-router';
import type { RouteRecordRaw, Router, RouterHistory } from 'vue-router';
import { onSignedOut } from '../api/client.ts';
import { useProperties } from '../stores/properties.ts';
import { useSession } from '../stores/session.ts';

declare module 'vue-router' {
  interface RouteMeta {
    /** The window’s title until the page gives its own. */
    title?: string;
    /** Open to people who are not signed in. */
    open?: boolean;
  }
}

const notFound = () => import('../views/NotFound.vue');

export const routes: RouteRecordRaw[] = [
  { path: '/', name: 'home', component: () => import('../views/Home.vue'), meta: { title: 'Properties' } },
  {
    path: '/sign-in',
    name: 'sign-in',
    component: () => import('../views/SignIn.vue'),
    meta: { title: 'Sign in', open: true },
  },
  {
    path: '/properties',
    name: 'properties',
    component: () => import('../views/Properties.vue'),
    meta: { title: 'Properties' },
  },
  {
    path: '/properties/new',
    name: 'new-property',
    component: () => import('../views/NewPropertyView.vue'),
    meta: { title: 'Add a property' },
  },
  {
    path: '/account',
    name: 'account',
    component: () => import('../views/AccountView.vue'),
    meta: { title: 'Account' },
  },
  {
    path: '/properties/:id',
    component: () => import('../views/PropertyShell.vue'),
    props: (to) => ({ id: to.params.id }),
    children: [
      { path: '', name: 'week', component: () => import('../views/Week.vue'), meta: { title: 'Week' } },
      { path: 'days', name: 'days', component: () => import('../views/CalendarDays.vue'), meta: { title: 'Days' } },
      {
        path: 'days/:date(\\d{4}-\\d{2}-\\d{2})',
        name: 'day',
        props: true,
        component: () => import('../views/Day.vue'),
        meta: { title: 'Day' },
      },
      {
        path: 'months',
        name: 'months',
        component: () => import('../views/CalendarMonths.vue'),
        meta: { title: 'Months' },
      },
      { path: 'year', name: 'year', component: () => import('../views/CalendarYear.vue'), meta: { title: 'Year' } },
      { path: 'logs', name: 'logs', component: () => import('../views/LogsView.vue'), meta: { title: 'Logs' } },
      {
        path: 'logs/:logId',
        name: 'log',
        props: true,
        component: () => import('../views/LogView.vue'),
        meta: { title: 'Log' },
      },
      {
        path: 'record',
        name: 'record',
        component: () => import('../views/SystemRecordView.vue'),
        meta: { title: 'System record' },
      },
      {
        path: 'sharing',
        name: 'sharing',
        component: () => import('../views/SharingView.vue'),
        meta: { title: 'Who sees what' },
      },
    ],
  },
  {
    path: '/:rest(.*)*',
    name: 'not-found',
    component: notFound,
    meta: { title: 'No such page', open: true },
  },
];

/** After a turn to another page (not another state of the same one) the heading takes the focus. */
async function focusHeading(): Promise<void> {
  await nextTick();
  const target = document.querySelector<HTMLElement>('main h1') ?? document.querySelector<HTMLElement>('main');
  target?.focus({ preventScroll: true });
}

/** The router, with the guard that asks for a sign-in and brings the person back afterwards. */
export function makeRouter(history: RouterHistory = createWebHistory()): Router {
  const router = createRouter({
    history,
    routes,
    scrollBehavior: (to, from, saved) => saved ?? (to.path === from.path ? {} : { top: 0 }),
  });

  router.beforeEach(async (to) => {
    if (to.meta.open) return true;
    const session = useSession();
    try {
      if (await session.ask()) return true;
    } catch {
      // The server does not answer: the page opens and says so itself, with a way to try again.
      return true;
    }
    return { name: 'sign-in', query: to.fullPath === '/' ? {} : { to: to.fullPath } };
  });

  router.afterEach((to, from, failure) => {
    if (failure) return;
    if (to.path !== from.path) {
      document.title = to.meta.title ? `${to.meta.title} · Coppernoon` : 'Coppernoon';
      // The first page is the browser's to focus.
      if (from.matched.length > 0) void focusHeading();
    }
  });

  onSignedOut(() => {
    useSession().forget();
    useProperties().forget();
    const here = router.currentRoute.value;
    if (here.name !== 'sign-in') void router.push({ name: 'sign-in', query: { to: here.fullPath } });
  });
  return router;
}
