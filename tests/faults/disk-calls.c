/*
 * Preloaded into a process (LD_PRELOAD), stands between it and the disk for the files of one folder, in two ways:
 *
 * DISK_RECORD names a file to which every call that changes a file or makes a change last is appended, in the order in which they happened and
 * with what was written: one lock is held during a call and its entry. An entry is 24 bytes (kind, inode, offset, length, in the machine's order)
 * and as many bytes as its length says: what was written, a path within the folder, or two paths with a 0 between.
 *
 * DISK_FAULT names a file that is shared with the test: the calls of the given kinds are counted there, and from the given one on as many as it
 * says fail with the given error. Of a write that finds the disk full, half is written first. Such a failure is an entry of the record too.
 *
 * The folder is DISK_FOLDER, as its path is written by the process. SQLite's index of the log (-shm) is memory, not disk, and left out.
 */
#define _GNU_SOURCE
#include <dlfcn.h>
#include <errno.h>
#include <fcntl.h>
#include <pthread.h>
#include <stdarg.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/mman.h>
#include <sys/stat.h>
#include <sys/syscall.h>
#include <sys/types.h>
#include <sys/uio.h>
#include <unistd.h>

enum { MADE = 1, WRITTEN = 2, CUT = 3, SYNCED = 4, FOLDER_SYNCED = 5, REMOVED = 6, RENAMED = 7, FAILED = 8 };
enum { MOST_FILES = 1024, MOST_PATH = 1024 };

struct entry {
  uint32_t kind, file;
  uint64_t offset, length;
};

struct fault {
  uint32_t kinds;    /* bits: 1 << kind */
  uint32_t after;    /* calls that pass before the first that fails */
  uint32_t failing;  /* calls that fail from there on */
  uint32_t code;     /* errno */
  uint32_t seen, failed;
};

struct file {
  dev_t dev;
  ino_t ino;
  char name[MOST_PATH];
};

static pthread_mutex_t lock = PTHREAD_MUTEX_INITIALIZER;
static const char *folder;
static size_t folder_length;
static dev_t folder_dev;
static ino_t folder_ino;
static int record = -1;
static volatile struct fault *fault;
static struct file files[MOST_FILES];
static uint32_t file_count;

static int (*real_open)(const char *, int, ...);
static ssize_t (*real_write)(int, const void *, size_t);
static ssize_t (*real_pwrite)(int, const void *, size_t, off_t);
static ssize_t (*real_writev)(int, const struct iovec *, int);
static ssize_t (*real_pwritev)(int, const struct iovec *, int, off_t);
static int (*real_ftruncate)(int, off_t);
static int (*real_fsync)(int);
static int (*real_fdatasync)(int);
static int (*real_unlink)(const char *);
static int (*real_rename)(const char *, const char *);

static void fail(const char *what) {
  dprintf(2, "disk-calls: %s: %s\n", what, strerror(errno));
  _exit(99);
}

static void *next_of(const char *name) {
  void *found = dlsym(RTLD_NEXT, name);
  if (!found) fail(name);
  return found;
}

__attribute__((constructor)) static void begin(void) {
  *(void **)&real_open = next_of("open64");
  *(void **)&real_write = next_of("write");
  *(void **)&real_pwrite = next_of("pwrite64");
  *(void **)&real_writev = next_of("writev");
  *(void **)&real_pwritev = next_of("pwritev64");
  *(void **)&real_ftruncate = next_of("ftruncate64");
  *(void **)&real_fsync = next_of("fsync");
  *(void **)&real_fdatasync = next_of("fdatasync");
  *(void **)&real_unlink = next_of("unlink");
  *(void **)&real_rename = next_of("rename");
  folder = getenv("DISK_FOLDER");
  if (!folder) return;
  folder_length = strlen(folder);
  struct stat status;
  if (stat(folder, &status) != 0) fail(folder);
  folder_dev = status.st_dev;
  folder_ino = status.st_ino;
  const char *path = getenv("DISK_RECORD");
  if (path) {
    record = real_open(path, O_WRONLY | O_CREAT | O_APPEND | O_CLOEXEC, 0600);
    if (record < 0) fail(path);
  }
  path = getenv("DISK_FAULT");
  if (path) {
    int shared = real_open(path, O_RDWR | O_CLOEXEC);
    if (shared < 0) fail(path);
    fault = (volatile struct fault *)mmap(NULL, sizeof(struct fault), PROT_READ | PROT_WRITE, MAP_SHARED, shared, 0);
    if (fault == MAP_FAILED) fail(path);
  }
}

/* The path within the folder; NULL for one outside. */
static const char *within(const char *path) {
  if (!folder || strncmp(path, folder, folder_length) != 0 || path[folder_length] != '/') return NULL;
  size_t length = strlen(path);
  if (length > 4 && strcmp(path + length - 4, "-shm") == 0) return NULL;
  return path + folder_length + 1;
}

/* The number of an open file of the folder from 1 on; 0 for what is none. */
static uint32_t number_of(int fd) {
  struct stat status;
  if (!folder || fstat(fd, &status) != 0 || !S_ISREG(status.st_mode)) return 0;
  for (uint32_t at = file_count; at > 0; at--)
    if (files[at - 1].dev == status.st_dev && files[at - 1].ino == status.st_ino) return at;
  return 0;
}

static int is_folder(int fd) {
  struct stat status;
  return folder && fstat(fd, &status) == 0 && status.st_dev == folder_dev && status.st_ino == folder_ino;
}

/* A name that no longer leads to its file: an open one that has lost it matters to nobody after a power cut. */
static void forget(const char *name) {
  for (uint32_t at = 0; at < file_count; at++)
    if (strcmp(files[at].name, name) == 0) {
      files[at].name[0] = 0;
      files[at].ino = 0;
    }
}

static void put(const void *bytes, size_t length) {
  for (const char *at = (const char *)bytes; length > 0;) {
    ssize_t wrote = real_write(record, at, length);
    if (wrote < 0) fail("the record");
    at += wrote;
    length -= (size_t)wrote;
  }
}

static void note(uint32_t kind, uint32_t file, uint64_t offset, const void *bytes, uint64_t length) {
  if (record < 0) return;
  struct entry entry = {kind, file, offset, length};
  put(&entry, sizeof entry);
  if (bytes && length > 0) put(bytes, (size_t)length);
}

/* Counts a call, and answers the error that it is to fail with; 0 for none. */
static int error_of(uint32_t kind) {
  if (!fault || !(fault->kinds & (1u << kind))) return 0;
  uint32_t seen = fault->seen++;
  if (seen < fault->after || seen - fault->after >= fault->failing) return 0;
  fault->failed++;
  return (int)fault->code;
}

static int opened(const char *path, int flags, int fd) {
  const char *name = within(path);
  struct stat status;
  if (fd < 0 || !name || fstat(fd, &status) != 0 || !S_ISREG(status.st_mode)) return fd;
  pthread_mutex_lock(&lock);
  uint32_t known = number_of(fd);
  if (known == 0 || strcmp(files[known - 1].name, name) != 0) {
    if (file_count == MOST_FILES || strlen(name) >= MOST_PATH) fail("too many files");
    struct file *one = &files[file_count++];
    one->dev = status.st_dev;
    one->ino = status.st_ino;
    strcpy(one->name, name);
    note(MADE, file_count, 0, name, strlen(name));
    known = file_count;
  }
  if (flags & O_TRUNC) note(CUT, known, 0, NULL, 0);
  pthread_mutex_unlock(&lock);
  return fd;
}

#define OPEN(NAME)                                                      \
  int NAME(const char *path, int flags, ...) {                          \
    va_list more;                                                       \
    va_start(more, flags);                                              \
    mode_t mode = flags & (O_CREAT | O_TMPFILE) ? va_arg(more, mode_t) : 0; \
    va_end(more);                                                       \
    return opened(path, flags, real_open(path, flags, mode));           \
  }
OPEN(open)
OPEN(open64)

static ssize_t write_at(int fd, const void *bytes, size_t length, int64_t offset) {
  uint32_t file = number_of(fd);
  if (file == 0) return offset < 0 ? real_write(fd, bytes, length) : real_pwrite(fd, bytes, length, offset);
  pthread_mutex_lock(&lock);
  int error = error_of(WRITTEN);
  ssize_t wrote = -1;
  if (error == ENOSPC && length > 1 && fault->failed == 1) {
    length /= 2;
    error = 0;
  }
  if (error) {
    note(FAILED, file, WRITTEN, NULL, 0);
    errno = error;
  } else {
    struct stat status;
    int append = offset < 0 && (fcntl(fd, F_GETFL) & O_APPEND);
    int64_t at = offset >= 0 ? offset : append && fstat(fd, &status) == 0 ? status.st_size : lseek(fd, 0, SEEK_CUR);
    wrote = offset < 0 ? real_write(fd, bytes, length) : real_pwrite(fd, bytes, length, offset);
    if (wrote > 0) note(WRITTEN, file, (uint64_t)at, bytes, (uint64_t)wrote);
  }
  int kept = errno;
  pthread_mutex_unlock(&lock);
  errno = kept;
  return wrote;
}

ssize_t write(int fd, const void *bytes, size_t length) { return write_at(fd, bytes, length, -1); }
ssize_t pwrite(int fd, const void *bytes, size_t length, off_t offset) { return write_at(fd, bytes, length, offset); }
ssize_t pwrite64(int fd, const void *bytes, size_t length, off64_t offset) { return write_at(fd, bytes, length, offset); }

/* Several pieces at once are written one after the other: nobody else sees them in between, since the lock is held for each whole piece. */
static ssize_t write_pieces(int fd, const struct iovec *pieces, int count, int64_t offset) {
  ssize_t sum = 0;
  for (int at = 0; at < count; at++) {
    ssize_t wrote = write_at(fd, pieces[at].iov_base, pieces[at].iov_len, offset < 0 ? -1 : offset + sum);
    if (wrote < 0) return sum > 0 ? sum : -1;
    sum += wrote;
    if ((size_t)wrote < pieces[at].iov_len) break;
  }
  return sum;
}

ssize_t writev(int fd, const struct iovec *pieces, int count) {
  return number_of(fd) ? write_pieces(fd, pieces, count, -1) : real_writev(fd, pieces, count);
}
ssize_t pwritev(int fd, const struct iovec *pieces, int count, off_t offset) {
  return number_of(fd) ? write_pieces(fd, pieces, count, offset) : real_pwritev(fd, pieces, count, offset);
}
ssize_t pwritev64(int fd, const struct iovec *pieces, int count, off64_t offset) { return pwritev(fd, pieces, count, offset); }

static int cut(int fd, off_t length) {
  uint32_t file = number_of(fd);
  if (file == 0) return real_ftruncate(fd, length);
  pthread_mutex_lock(&lock);
  int error = error_of(CUT);
  int result = error ? -1 : real_ftruncate(fd, length);
  int kept = error ? error : errno;
  if (error) note(FAILED, file, CUT, NULL, 0);
  else if (result == 0) note(CUT, file, (uint64_t)length, NULL, 0);
  pthread_mutex_unlock(&lock);
  errno = kept;
  return result;
}
int ftruncate(int fd, off_t length) { return cut(fd, length); }
int ftruncate64(int fd, off64_t length) { return cut(fd, length); }

/* What is to last lasts when the real call says so. */
static int sync_file(int fd, int (*real)(int)) {
  uint32_t file = number_of(fd);
  int of_folder = file == 0 && is_folder(fd);
  if (file == 0 && !of_folder) return real(fd);
  pthread_mutex_lock(&lock);
  int error = error_of(SYNCED);
  int result = error ? -1 : real(fd);
  int kept = error ? error : errno;
  if (error) note(FAILED, file, SYNCED, NULL, 0);
  else if (result == 0) note(of_folder ? FOLDER_SYNCED : SYNCED, file, 0, NULL, 0);
  pthread_mutex_unlock(&lock);
  errno = kept;
  return result;
}
int fsync(int fd) { return sync_file(fd, real_fsync); }
int fdatasync(int fd) { return sync_file(fd, real_fdatasync); }

int unlink(const char *path) {
  const char *name = within(path);
  pthread_mutex_lock(&lock);
  int result = real_unlink(path);
  int kept = errno;
  if (name && result == 0) {
    forget(name);
    note(REMOVED, 0, 0, name, strlen(name));
  }
  pthread_mutex_unlock(&lock);
  errno = kept;
  return result;
}

int rename(const char *from, const char *to) {
  const char *old = within(from), *name = within(to);
  pthread_mutex_lock(&lock);
  int result = real_rename(from, to);
  int kept = errno;
  if (old && name && result == 0) {
    char both[2 * MOST_PATH];
    int length = snprintf(both, sizeof both, "%s%c%s", old, 0, name);
    forget(name);
    for (uint32_t at = 0; at < file_count; at++)
      if (strcmp(files[at].name, old) == 0) strcpy(files[at].name, name);
    note(RENAMED, 0, 0, both, (uint64_t)length);
  }
  pthread_mutex_unlock(&lock);
  errno = kept;
  return result;
}
