/** Wires the client together. */
import { createPinia } from 'pinia';
import { createApp } from 'vue';
import App from './App.vue';
import { makeRouter } from './router/index.ts';
import './theme/fonts.css';
import './theme/tokens.css';
import './theme/base.css';

const app = createApp(App);
app.use(createPinia());
app.use(makeRouter());
app.mount('#app');
