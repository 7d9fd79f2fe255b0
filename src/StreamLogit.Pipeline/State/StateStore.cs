using System.Collections.Immutable;
using System.Globalization;
using Microsoft.Data.Sqlite;
using StreamLogit.Engine;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline.State;

/// <summary>The state of a worker: one SQLite database in a folder that it has for itself. Every commit is a checkpoint.</summary>
public sealed class StateStore : IDisposable
{
    private const string StreamKey = "stream";
    private const string DefinitionKey = "definition";
    private const string CommitsKey = "commits";

    private readonly StateLock _lock;
    private readonly StateDatabase _database;
    private readonly string _stream;
    private readonly string _definition;
    private long _commits;
    private long _journal; // entries whose transactions were committed

    private StateStore(StateLock folderLock, StateDatabase database, string stream, string definition)
    {
        _lock = folderLock;
        _database = database;
        _stream = stream;
        _definition = definition;
        _commits = ReadCommits(database);
        Archive = new StateArchive(new BlockReader(database.Path));
    }

    /// <summary>Where the engine puts what it has no room for in memory.</summary>
    public StateArchive Archive { get; }

    /// <summary>Called within a commit, of a journal's entry too, when all is written and nothing counts yet; tests die here.</summary>
    internal Action? BeforeCommit { get; set; }

    /// <summary>Opens the state of a folder for a worker, and makes it where there is none.</summary>
    /// <param name="folder">The folder.</param>
    /// <param name="stream">The stream that the state must belong to.</param>
    /// <param name="definition">The definition of this run, JSON, which the state keeps for those who look at it.</param>
    /// <exception cref="PipelineException">Another worker has it, it belongs to another stream, is damaged or cannot be written.</exception>
    public static StateStore Open(string folder, string stream, string definition)
    {
        string path = Path.Combine(folder, StateDatabase.FileName);
        StateLock? folderLock = null;
        StateDatabase? database = null;
        try
        {
            Directory.CreateDirectory(folder);
            folderLock = StateLock.Take(folder);
            database = Guard(path, () => StateDatabase.Open(path, SqliteOpenMode.ReadWriteCreate));
            if (Guard(path, () => database.ReadMeta(StreamKey)) is { } owner && owner != stream)
                throw new PipelineException($"The state {path} belongs to the stream '{owner}', not to '{stream}'.");
            return Guard(path, () => new StateStore(folderLock, database, stream, definition));
        }
        catch (Exception e) when (e is PipelineException or IOException or UnauthorizedAccessException)
        {
            database?.Dispose();
            folderLock?.Dispose();
            if (e is PipelineException) throw;
            throw StorageFault.OfFile(folder, e);
        }
    }

    /// <summary>Reads the last checkpoint of a folder without a claim to it; a worker may be running on it.</summary>
    /// <exception cref="PipelineException">There is none, or it cannot be read.</exception>
    public static (StateInfo Info, Checkpoint Checkpoint) Peek(string folder)
    {
        string path = Path.Combine(folder, StateDatabase.FileName);
        if (!File.Exists(path)) throw new PipelineException($"There is no state in {folder}.");
        return Guard(path, () =>
        {
            using var database = StateDatabase.Open(path, SqliteOpenMode.ReadOnly);
            using var transaction = database.BeginRead();
            long commits = ReadCommits(database);
            if (commits == 0) throw new PipelineException($"The state {path} has no commit yet.");
            var info = new StateInfo(database.ReadMeta(StreamKey) ?? "", database.ReadMeta(DefinitionKey) ?? "", commits, [.. database.ReadParts()]);
            return (info, Read(database));
        });
    }

    /// <summary>The last checkpoint, or null where nothing was ever committed.</summary>
    /// <exception cref="PipelineException">It cannot be read.</exception>
    public Checkpoint? Read() => _commits == 0 ? null : Guard(_database.Path, () => Read(_database));

    /// <summary>Commits a checkpoint, all of it or nothing.</summary>
    /// <param name="checkpoint">The checkpoint.</param>
    /// <param name="keepsJournal">Whether it stands before the transactions of the journal, and not behind them.</param>
    /// <exception cref="PipelineException">It was not committed: the disk is full or failed.</exception>
    public void Commit(Checkpoint checkpoint, bool keepsJournal = false) => Guard(_database.Path, () =>
    {
        using var transaction = _database.Begin();
        _database.WriteBlocks(checkpoint.Blocks, transaction);
        _database.WritePosition(checkpoint.Position);
        _database.WriteMarks(checkpoint.Marks);
        _database.WriteMeta(StreamKey, _stream);
        _database.WriteMeta(DefinitionKey, _definition);
        _database.WriteMeta(CommitsKey, (_commits + 1).ToString(CultureInfo.InvariantCulture));
        if (!keepsJournal) _database.TruncateJournal(0);
        BeforeCommit?.Invoke();
        transaction.Commit();
        if (!keepsJournal) _journal = 0;
        _database.GiveRoomBack();
        return ++_commits;
    });

    /// <summary>The journal: the records of the transactions since the last commit, the last of which perhaps came to nothing.</summary>
    /// <exception cref="PipelineException">It cannot be read.</exception>
    public ImmutableArray<JournalEntry> ReadJournal() => Guard(_database.Path, _database.ReadJournal);

    /// <summary>Says how many entries of the journal, from the first, are of transactions that were committed. The next one is written behind them.</summary>
    public void KeepJournal(int entries) => _journal = entries;

    /// <summary>Writes an entry into the journal, in place of one whose transaction came to nothing.</summary>
    /// <exception cref="PipelineException">It was not written: the disk is full or failed.</exception>
    public void AppendJournal(JournalEntry entry) => Guard(_database.Path, () =>
    {
        using var transaction = _database.Begin();
        _database.WriteJournal(_journal, entry);
        BeforeCommit?.Invoke();
        transaction.Commit();
        return true;
    });

    /// <summary>Says that the transaction of the entry written last was committed.</summary>
    public void ConfirmJournal() => _journal++;

    /// <inheritdoc/>
    public void Dispose()
    {
        Archive.Dispose();
        _database.Dispose();
        _lock.Dispose();
    }

    private static Checkpoint Read(StateDatabase database) =>
        new(database.ReadPosition(), database.ReadMarks(), database.ReadBlocks(ScoringEngine.ArchivedParts));

    private static long ReadCommits(StateDatabase database) =>
        database.ReadMeta(CommitsKey) is { } commits ? long.Parse(commits, CultureInfo.InvariantCulture) : 0;

    private static T Guard<T>(string path, Func<T> use)
    {
        try
        {
            return use();
        }
        catch (SqliteException e)
        {
            throw StorageFault.OfDatabase(path, e);
        }
        catch (Exception e) when (e is InvalidCastException or FormatException or OverflowException)
        {
            throw StorageFault.Damaged(path, "it holds values of another kind than it should", e);
        }
    }
}
