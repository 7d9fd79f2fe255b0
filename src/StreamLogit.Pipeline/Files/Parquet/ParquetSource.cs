using System.Globalization;
using System.IO.Hashing;
using Parquet;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// The rows of a Parquet file, each as a JSON object whose keys are the names of the columns. Holds two row groups in memory: the one that rows are
/// taken from, and the next, which is read meanwhile.
/// </summary>
/// <remarks>Offsets are rows; the fingerprint of a position is that of the row before it.</remarks>
public sealed class ParquetSource : IRecordSource
{
    private readonly string _path;
    private readonly string _origin;
    private readonly int _maximumBytes;
    private readonly FileStream _file;
    private readonly ParquetReader _reader;
    private readonly long[] _firstRows; // of every group, and behind them the number of all rows
    private ParquetRowGroup _group;
    private ParquetRowGroup _spare;
    private Task? _loading; // of _spare, from the group _nextGroup - 1
    private int _nextGroup;
    private long _row;

    private ParquetSource(string path, int maximumBytes, FileStream file, ParquetReader reader)
    {
        _path = path;
        _origin = Path.GetFileName(path);
        _maximumBytes = maximumBytes;
        _file = file;
        _reader = reader;
        _firstRows = new long[reader.RowGroupCount + 1];
        for (int group = 0; group < reader.RowGroupCount; group++)
        {
            using var rows = reader.OpenRowGroupReader(group);
            _firstRows[group + 1] = _firstRows[group] + rows.RowCount;
        }
        _group = new ParquetRowGroup(reader.Schema.DataFields);
        _spare = new ParquetRowGroup(reader.Schema.DataFields);
    }

    /// <inheritdoc/>
    public SourcePosition Position => new([new OriginPosition(_origin, _row, _row, FingerprintOf(_row - 1))]);

    /// <inheritdoc/>
    public SourceProgress Progress
    {
        get
        {
            long rows = _firstRows[^1];
            long bytes = _file.Length;
            return new SourceProgress(rows == 0 ? bytes : (long)((double)Volatile.Read(ref _row) / rows * bytes), bytes);
        }
    }

    /// <summary>Opens a file.</summary>
    /// <param name="path">The file.</param>
    /// <param name="maximumBytes">The longest record as JSON; a longer one becomes a reject.</param>
    /// <exception cref="InvalidRecordingException">There is no such file, or it is no Parquet file.</exception>
    public static ParquetSource Open(string path, int maximumBytes)
    {
        FileStream? file = null;
        try
        {
            file = new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.Read | FileShare.Delete);
            var stream = file;
            // Columns of bytes are text to nearly every writer that does not say so.
            var options = new ParquetOptions { TreatByteArrayAsString = true };
            var reader = Task.Run(() => ParquetReader.CreateAsync(stream, options, leaveStreamOpen: true)).GetAwaiter().GetResult();
            return new ParquetSource(path, maximumBytes, file, reader);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            throw new InvalidRecordingException($"The recording {path} does not exist.", e);
        }
        catch (Exception e) when (IsUnreadable(e))
        {
            file?.Dispose();
            throw new InvalidRecordingException($"The recording {path} cannot be opened as Parquet: {e.Message}", e);
        }
    }

    /// <inheritdoc/>
    public void Seek(SourcePosition position)
    {
        if (position.Origins is not [{ Number: > 0 } origin]) return;
        if (origin.Offset > _firstRows[^1])
            throw new PipelineException(
                $"{_path} has fewer than the {origin.Offset} rows that were read of it before. Put the whole file back, or begin with a new state folder.");
        _nextGroup = Array.FindIndex(_firstRows, first => first >= origin.Offset) - 1;
        Task.Run(TakeGroupAsync).GetAwaiter().GetResult();
        _row = origin.Offset;
        if (FingerprintOf(_row - 1) != origin.Fingerprint)
            throw new PipelineException(
                $"{_path} is another file than the one that was read before: row {origin.Offset} differs. "
                + "Put the old file back, or begin with a new state folder.");
    }

    /// <inheritdoc/>
    public async ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        batch.Origin = _origin;
        if (cancellation.IsCancellationRequested) return FillOutcome.Idle;
        while (_row == _group.FirstRow + _group.Count)
        {
            if (_row == _firstRows[^1]) return FillOutcome.Ended;
            await TakeGroupAsync().ConfigureAwait(false);
        }
        Take(batch, maximumRecords);
        return FillOutcome.Filled;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        // What is being read must not find its file closed.
        _loading?.ContinueWith(_ => { }, TaskScheduler.Default).Wait();
        Task.Run(async () => await _reader.DisposeAsync().ConfigureAwait(false)).GetAwaiter().GetResult();
        _file.Dispose();
    }

    private void Take(RecordBatch batch, int maximumRecords)
    {
        int row = (int)(_row - _group.FirstRow);
        int end = Math.Min(row + maximumRecords, _group.Count);
        for (; row < end; row++)
        {
            var json = _group.Json(row);
            long number = _group.FirstRow + row + 1;
            if (json.Length <= _maximumBytes) batch.Add(json, number);
            else batch.AddTooLong(json[..Math.Min(LongLine.ShownBytes, _maximumBytes)], number,
                string.Create(CultureInfo.InvariantCulture, $"{json.Length} bytes; at most {_maximumBytes} are allowed"));
        }
        Volatile.Write(ref _row, _group.FirstRow + end);
    }

    /// <summary>Goes on to the next row group, and begins to read the one behind it.</summary>
    private async Task TakeGroupAsync()
    {
        try
        {
            await (_loading ?? LoadNextAsync()).ConfigureAwait(false);
        }
        catch (Exception e) when (IsUnreadable(e))
        {
            throw new PipelineException($"{_path} cannot be read: {e.Message}", e);
        }
        (_group, _spare) = (_spare, _group);
        _loading = _nextGroup < _reader.RowGroupCount ? LoadNextAsync() : null;
    }

    private Task LoadNextAsync()
    {
        int group = _nextGroup++;
        var target = _spare;
        return Task.Run(() => target.LoadAsync(_reader, group, _firstRows[group]));
    }

    private ulong FingerprintOf(long row) =>
        row < _group.FirstRow || row >= _group.FirstRow + _group.Count ? 0 : XxHash3.HashToUInt64(_group.Json((int)(row - _group.FirstRow)));

    // A damaged file shows in whatever way the reader stumbles over it.
    private static bool IsUnreadable(Exception cause) => cause is not (OutOfMemoryException or PipelineException);
}
