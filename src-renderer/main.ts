import { mount } from 'svelte';
import App from './App.svelte';
import './theme/page.css';

const target = document.getElementById('page');
if (!target) throw new Error('index.html holds no place for the page');
mount(App, { target });
