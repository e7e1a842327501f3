import { flushPromises, mount } from '@vue/test-utils';
import { createPinia } from 'pinia';
import { createMemoryHistory, createRouter } from 'vue-router';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { createVuetify } from 'vuetify';
import SignIn from '../../../../src/views/SignIn.vue';

async function page(path = '/sign-in') {
  const empty = { template: '<p />' };
  const router = createRouter({
    history: createMemoryHistory(),
    routes: [
      { path: '/sign-in', component: empty },
      { path: '/:rest(.*)*', component: empty },
    ],
  });
  await router.push(path);
  const wrapper = mount(SignIn, {
    global: { plugins: [createPinia(), router, createVuetify()] },
    attachTo: document.body,
  });
  const fill = async (email: string, password: string) => {
    await wrapper.get('#email').setValue(email);
    await wrapper.get('#password').setValue(password);
    await wrapper.get('form').trigger('submit');
    await flushPromises();
  };
  return { wrapper, router, fill };
}
function answer(status: number, body: object) {
  const fetched = vi.fn((_url: string, _init: RequestInit) => Promise.resolve(Response.json(body, { status })));
  vi.stubGlobal('fetch', fetched);
  return fetched;
}
afterEach(() => vi.unstubAllGlobals());

describe('sign in', () => {
  it('when fields are empty then each says what is wrong, the summary takes the focus, nothing is sent', async () => {
    const fetched = answer(200, {});
    const { wrapper, fill } = await page();
    await fill('', '');
    expect(fetched).not.toHaveBeenCalled();
    expect(wrapper.get('#email-error').text()).toContain('Enter the e-mail address');
    expect(wrapper.get('#password-error').text()).toContain('Enter the password');
    expect(wrapper.get('#email').attributes()).toMatchObject({
      'aria-invalid': 'true',
      'aria-describedby': 'email-error',
    });
    expect(document.activeElement).toBe(wrapper.get('[role="alert"]').element);
  });
  it('when the server refuses then it is said without telling which of the two was wrong', async () => {
    answer(401, { title: 'Wrong', status: 401, detail: 'x' });
    const { wrapper, fill } = await page();
    await fill('a@example.test', 'secret');
    expect(wrapper.get('[role="alert"]').text()).toContain('The address or the password is not right');
    expect(wrapper.get<HTMLInputElement>('#email').element.value).toBe('a@example.test');
  });
  it('when there were too many tries then the server’s own words stand there', async () => {
    answer(429, { title: 'Too many', status: 429, detail: 'Wait five minutes.' });
    const { wrapper, fill } = await page();
    await fill('a@example.test', 'secret');
    expect(wrapper.get('[role="alert"]').text()).toContain('Wait five minutes.');
  });
  it('when it goes well then the person comes back to the page asked for', async () => {
    answer(200, { user: { id: '1', email: 'a@example.test', name: 'A' } });
    const { router, fill } = await page('/sign-in?to=/properties/abc/days?month=2026-05');
    await fill('a@example.test', 'secret');
    expect(router.currentRoute.value.fullPath).toBe('/properties/abc/days?month=2026-05');
  });
  it.each(['//elsewhere.example', '/\\elsewhere.example', 'https://elsewhere.example'])(
    'when the way back is %s then it leads home, not to another host',
    async (to) => {
      answer(200, { user: { id: '1', email: 'a@example.test', name: 'A' } });
      const { router, fill } = await page(`/sign-in?to=${encodeURIComponent(to)}`);
      await fill('a@example.test', 'secret');
      expect(router.currentRoute.value.fullPath).toBe('/');
    },
  );
});
