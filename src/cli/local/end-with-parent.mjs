// Loaded before the server: when the starting process is gone, even by kill -9, the server follows.
process.once('disconnect', () => {
	process.kill(process.pid, 'SIGTERM');
	// What does not end by itself is ended: the next start needs the port.
	setTimeout(() => process.exit(1), 7000).unref();
});
process.channel?.unref();
