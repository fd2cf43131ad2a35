import { ASK, type Door, TELL } from '@core/protocol/channels';
import { contextBridge, type IpcRendererEvent, ipcRenderer } from 'electron';

const door: Door = {
  ask: (question, payload) => ipcRenderer.invoke(ASK, question, payload),
  listen: (listener) => {
    const heard = (_event: IpcRendererEvent, told: unknown) => listener(told);
    ipcRenderer.on(TELL, heard);
    return () => void ipcRenderer.off(TELL, heard);
  },
};
contextBridge.exposeInMainWorld('steelyard', door);
