import Database from 'better-sqlite3';

// Another process that holds the write lock of a database until its standard input ends.
const db = new Database(process.argv[2]);
db.exec('BEGIN IMMEDIATE');
process.stdout.write('held\n');
process.stdin.resume().once('end', () => {
  db.exec('ROLLBACK');
  db.close();
});
