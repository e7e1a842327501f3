import { createApp } from 'vue';
import { createPinia } from 'pinia';
import App from './App.vue';
import { vuetify } from './plugins/vuetify.ts';
import { makeRouter } from './router/index.ts';
import './styles/main.css';

createApp(App).use(createPinia()).use(vuetify).use(makeRouter()).mount('#app');
