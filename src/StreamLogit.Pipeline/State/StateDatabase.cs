using System.Collections.Immutable;
using System.IO.Hashing;
using Microsoft.Data.Sqlite;
using StreamLogit.Engine;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline.State;

/// <summary>The tables of a state.</summary>
/// <remarks>
/// SQLite does not check what it reads for flipped bits, and a coefficient with a flipped bit looks like any other; so every block
/// carries its XXH3. The one part that has very many small blocks has a table for itself, in which a block costs a few bytes besides its own.
/// </remarks>
internal sealed class StateDatabase : IDisposable
{
    /// <summary>The file in the state folder.</summary>
    public const string FileName = "state.db";

    private const string ReadBlockSql = "SELECT hash, bytes FROM blocks WHERE part = $part AND number = $number";
    private const string ReadSmallBlockSql = "SELECT hash, bytes FROM small_blocks WHERE number = $number";
    private const int MostFreePages = 4096;

    private readonly SqliteConnection _connection;
    private readonly SqliteCommand _putBlock;
    private readonly SqliteCommand _removeBlock;
    private readonly SqliteCommand _readBlock;
    private readonly SqliteCommand _putSmallBlock;
    private readonly SqliteCommand _removeSmallBlock;
    private readonly SqliteCommand _readSmallBlock;

    private StateDatabase(string path, SqliteConnection connection)
    {
        Path = path;
        _connection = connection;
        _putBlock = Command("INSERT INTO blocks(part, number, hash, bytes) VALUES ($part, $number, $hash, $bytes) "
            + "ON CONFLICT(part, number) DO UPDATE SET hash = excluded.hash, bytes = excluded.bytes", "$part", "$number", "$hash", "$bytes");
        _readBlock = Command(ReadBlockSql, "$part", "$number");
        _removeBlock = Command("DELETE FROM blocks WHERE part = $part AND number = $number", "$part", "$number");
        _putSmallBlock = Command("INSERT INTO small_blocks(number, hash, bytes) VALUES ($number, $hash, $bytes) "
            + "ON CONFLICT(number) DO UPDATE SET hash = excluded.hash, bytes = excluded.bytes", "$number", "$hash", "$bytes");
        _readSmallBlock = Command(ReadSmallBlockSql, "$number");
        _removeSmallBlock = Command("DELETE FROM small_blocks WHERE number = $number", "$number");
    }

    /// <summary>Where it lies.</summary>
    public string Path { get; }

    /// <summary>Opens the database, and makes its tables where it is new.</summary>
    /// <exception cref="SqliteException">It cannot be opened.</exception>
    public static StateDatabase Open(string path, SqliteOpenMode mode)
    {
        var connection = new SqliteConnection(new SqliteConnectionStringBuilder
        {
            DataSource = path,
            Mode = mode,
            Pooling = false,
            DefaultTimeout = 5,
        }.ToString());
        try
        {
            connection.Open();
            StateSchema.Prepare(connection, path, mode);
            return new StateDatabase(path, connection);
        }
        catch
        {
            connection.Dispose();
            throw;
        }
    }

    /// <summary>Opens a new database that need not outlive the process.</summary>
    /// <exception cref="SqliteException">It cannot be made.</exception>
    public static StateDatabase OpenTemporary(string path)
    {
        var database = Open(path, SqliteOpenMode.ReadWriteCreate);
        database.Execute("PRAGMA journal_mode = OFF");
        database.Execute("PRAGMA synchronous = OFF");
        return database;
    }

    /// <summary>Begins a transaction. Disposing of it without a commit takes all its writes back.</summary>
    public SqliteTransaction Begin() => _connection.BeginTransaction(deferred: false);

    /// <summary>Begins a transaction that sees one moment of the database, whatever others write.</summary>
    public SqliteTransaction BeginRead() => _connection.BeginTransaction(deferred: true);

    /// <summary>The value of a key of the meta table, or null.</summary>
    public string? ReadMeta(string key)
    {
        using var command = Command("SELECT value FROM meta WHERE key = $key", "$key");
        command.Parameters[0].Value = key;
        return (string?)command.ExecuteScalar();
    }

    /// <summary>Puts the value of a key of the meta table.</summary>
    public void WriteMeta(string key, string value) =>
        Execute("INSERT INTO meta(key, value) VALUES ($key, $value) ON CONFLICT(key) DO UPDATE SET value = excluded.value",
            ("$key", key), ("$value", value));

    public SourcePosition ReadPosition()
    {
        using var command = Command("SELECT origin, offset, number, fingerprint FROM positions ORDER BY place");
        using var reader = command.ExecuteReader();
        var origins = ImmutableArray.CreateBuilder<OriginPosition>();
        while (reader.Read())
            origins.Add(new OriginPosition(reader.GetString(0), reader.GetInt64(1), reader.GetInt64(2), unchecked((ulong)reader.GetInt64(3))));
        return new SourcePosition(origins.ToImmutable());
    }

    public void WritePosition(SourcePosition position)
    {
        Execute("DELETE FROM positions");
        for (int place = 0; place < position.Origins.Length; place++)
        {
            var origin = position.Origins[place];
            Execute("INSERT INTO positions(place, origin, offset, number, fingerprint) VALUES ($place, $origin, $offset, $number, $fingerprint)",
                ("$place", place), ("$origin", origin.Origin), ("$offset", origin.Offset), ("$number", origin.Number),
                ("$fingerprint", unchecked((long)origin.Fingerprint)));
        }
    }

    /// <summary>The entries of the journal in their order.</summary>
    public ImmutableArray<JournalEntry> ReadJournal()
    {
        using var command = Command("SELECT hash, bytes FROM journal ORDER BY number");
        using var reader = command.ExecuteReader();
        var entries = ImmutableArray.CreateBuilder<JournalEntry>();
        while (reader.Read())
        {
            byte[] bytes = reader.GetFieldValue<byte[]>(1);
            if (Hash(bytes) != reader.GetInt64(0)) throw StorageFault.Damaged(Path, "an entry of the journal changed since it was written");
            entries.Add(JournalEntry.FromBytes(bytes));
        }
        return entries.ToImmutable();
    }

    /// <summary>Puts an entry into the journal, in place of all from that number on.</summary>
    public void WriteJournal(long number, JournalEntry entry)
    {
        byte[] bytes = entry.ToBytes();
        TruncateJournal(number);
        Execute("INSERT INTO journal(number, hash, bytes) VALUES ($number, $hash, $bytes)", ("$number", number), ("$hash", Hash(bytes)), ("$bytes", bytes));
    }

    /// <summary>Takes all entries from a number on out of the journal.</summary>
    public void TruncateJournal(long number) => Execute("DELETE FROM journal WHERE number >= $number", ("$number", number));

    public ImmutableSortedDictionary<string, long> ReadMarks()
    {
        using var command = Command("SELECT name, mark FROM outputs");
        using var reader = command.ExecuteReader();
        var marks = ImmutableSortedDictionary.CreateBuilder<string, long>(StringComparer.Ordinal);
        while (reader.Read()) marks[reader.GetString(0)] = reader.GetInt64(1);
        return marks.ToImmutable();
    }

    public void WriteMarks(ImmutableSortedDictionary<string, long> marks)
    {
        foreach (var (name, mark) in marks)
            Execute("INSERT INTO outputs(name, mark) VALUES ($name, $mark) ON CONFLICT(name) DO UPDATE SET mark = excluded.mark",
                ("$name", name), ("$mark", mark));
    }

    /// <summary>All blocks but those of the parts that an engine reads one by one.</summary>
    public StateBlocks ReadBlocks(IReadOnlyList<string> exceptParts)
    {
        using var command = Command(ReadBlockSql, "$part", "$number"); // within whatever transaction is under way
        var blocks = new StateBlocks();
        foreach (string part in ReadParts().Select(p => p.Name).Except(exceptParts))
        {
            foreach (long number in ReadNumbers(part))
            {
                byte[] bytes = [];
                int length = ReadBlock(command, part, number, ref bytes) ?? 0;
                blocks.Put(part, number, bytes.AsSpan(0, length));
            }
        }
        return blocks;
    }

    /// <summary>The length of a block, which is read into the front of <paramref name="target"/>; null where there is no such block.</summary>
    public int? ReadBlock(string part, long number, ref byte[] target) =>
        ReadBlock(IsSmall(part) ? _readSmallBlock : _readBlock, part, number, ref target);

    private int? ReadBlock(SqliteCommand command, string part, long number, ref byte[] target)
    {
        if (!IsSmall(part)) command.Parameters[0].Value = part;
        command.Parameters[command.Parameters.Count - 1].Value = number;
        using var reader = command.ExecuteReader();
        if (!reader.Read()) return null;
        int length = (int)reader.GetBytes(1, 0, null, 0, 0);
        if (target.Length < length) target = new byte[length];
        reader.GetBytes(1, 0, target, 0, length);
        if (reader.GetInt64(0) != Hash(target.AsSpan(0, length)))
            throw StorageFault.Damaged(Path, $"block {number} of its part '{part}' has changed since it was written");
        return length;
    }

    /// <summary>The numbers of the blocks of a part, in their order.</summary>
    public IReadOnlyList<long> ReadNumbers(string part)
    {
        string sql = IsSmall(part) ? "SELECT number FROM small_blocks ORDER BY number" : "SELECT number FROM blocks WHERE part = $part ORDER BY number";
        using var command = Command(sql, "$part");
        command.Parameters[0].Value = part;
        using var reader = command.ExecuteReader();
        var numbers = new List<long>();
        while (reader.Read()) numbers.Add(reader.GetInt64(0));
        return numbers;
    }

    /// <summary>The parts and how much room each takes.</summary>
    public IReadOnlyList<StatePart> ReadParts()
    {
        using var command = Command("SELECT part, count(*), sum(length(bytes)) FROM blocks GROUP BY part ORDER BY part");
        using var reader = command.ExecuteReader();
        var parts = new List<StatePart>();
        while (reader.Read()) parts.Add(new StatePart(reader.GetString(0), reader.GetInt64(1), reader.GetInt64(2)));
        using var small = Command("SELECT count(*), sum(length(bytes)) FROM small_blocks HAVING count(*) > 0");
        using var smallReader = small.ExecuteReader();
        if (smallReader.Read()) parts.Add(new StatePart(ScoringEngine.SmallBlocksPart, smallReader.GetInt64(0), smallReader.GetInt64(1)));
        return parts;
    }

    /// <summary>Gives room that removed blocks have left back to the disk, a little at a time, when there is much of it.</summary>
    public void GiveRoomBack()
    {
        long free = Pragma("freelist_count");
        if (free * 4 > Pragma("page_count") && free > MostFreePages) Execute($"PRAGMA incremental_vacuum({MostFreePages})");

        long Pragma(string name)
        {
            using var command = Command($"PRAGMA {name}");
            return (long)(command.ExecuteScalar() ?? 0L);
        }
    }

    public void WriteBlocks(StateBlocks changes, SqliteTransaction transaction)
    {
        foreach (var command in new[] { _putBlock, _removeBlock, _putSmallBlock, _removeSmallBlock }) command.Transaction = transaction;
        foreach (var (part, number, bytes) in changes.Changes())
        {
            bool isSmall = IsSmall(part);
            var command = bytes is null ? (isSmall ? _removeSmallBlock : _removeBlock) : isSmall ? _putSmallBlock : _putBlock;
            int next = 0;
            if (!isSmall) command.Parameters[next++].Value = part;
            command.Parameters[next++].Value = number;
            if (bytes is not null)
            {
                command.Parameters[next++].Value = Hash(bytes);
                command.Parameters[next].Value = bytes;
            }
            command.ExecuteNonQuery();
        }
    }

    public void Dispose()
    {
        _putBlock.Dispose();
        _removeBlock.Dispose();
        _readBlock.Dispose();
        _putSmallBlock.Dispose();
        _removeSmallBlock.Dispose();
        _readSmallBlock.Dispose();
        _connection.Dispose();
    }

    private static bool IsSmall(string part) => part == ScoringEngine.SmallBlocksPart;

    private static long Hash(ReadOnlySpan<byte> bytes) => unchecked((long)XxHash3.HashToUInt64(bytes));

    private void Execute(string sql, params ReadOnlySpan<(string Name, object Value)> parameters)
    {
        using var command = _connection.CreateCommand();
        command.CommandText = sql;
        foreach (var (name, value) in parameters) command.Parameters.AddWithValue(name, value);
        command.ExecuteNonQuery();
    }

    private SqliteCommand Command(string sql, params ReadOnlySpan<string> parameters)
    {
        var command = _connection.CreateCommand();
        command.CommandText = sql;
        foreach (string name in parameters) command.Parameters.Add(new SqliteParameter { ParameterName = name });
        return command;
    }
}
