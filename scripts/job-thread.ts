/** What each calculation of the worker runs in: its own thread, which a cancel ends. */
import '@/lib/server/jobs/thread';
