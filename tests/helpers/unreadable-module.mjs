// Loaded into a server before everything else: one of its modules can't be read, as without file descriptors.
import Module from 'node:module';

const load = Module._load;
Module._load = function unreadable(request, parent, ...rest) {
  if (request === './sequelize' && parent?.filename?.endsWith('/sequelize/lib/index.js')) {
    throw Object.assign(new Error(`EMFILE: too many open files, open '${request}'`), { code: 'EMFILE' });
  }
  return load.call(this, request, parent, ...rest);
};
