// Loaded before the server: when the starting process is gone, even by kill -9, the server follows.
process.once('disconnect', () => process.kill(process.pid, 'SIGTERM'));
process.channel?.unref();
