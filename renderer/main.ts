import { mount } from 'svelte';
import './app.css';
import { WorkerEngine } from './engine/engine';
import { spawnWorker } from './engine/spawn';
import App from './frame/App.svelte';
import { browserShell } from './shells/browser';
import { desktopShell } from './shells/desktop';
import { Desk } from './state/desk.svelte';

const target = document.getElementById('app');
if (!target) throw new Error('the page has no #app element');

const shell = window.desktop ? desktopShell(window.desktop) : browserShell();
const desk = new Desk(new WorkerEngine(spawnWorker), shell);

// Charts draw on a canvas, which does not wait for fonts by itself: load the four files first.
const FONT = '"Ysabeau Office Variable"';
await Promise.all([480, 650].map((weight) => document.fonts.load(`${weight} 14px ${FONT}`, 'Aλ⁴▲−')));
mount(App, { target, props: { desk } });
void desk.begin();
