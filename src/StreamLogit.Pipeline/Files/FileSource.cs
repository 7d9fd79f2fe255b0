using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Options;
using ZstdSharp;

namespace StreamLogit.Pipeline.Files;

/// <summary>The records of one text file, or of standard input.</summary>
public sealed class FileSource : IRecordSource
{
    private static readonly TimeSpan IdleWait = TimeSpan.FromMilliseconds(100);

    private readonly RecordingFile _file;
    private readonly IRecordCutter _cutter;
    private readonly bool _follow;
    private readonly TimeProvider _time;
    private readonly ReadWindow _window = new();

    private Task<int>? _pendingRead;
    private SourcePosition? _longLineStart;
    private bool _isResumed;
    private bool _isBegun;
    private bool _atEnd;
    private long _bytesRead;
    private long _totalBytes;

    private FileSource(RecordingFile file, IRecordCutter cutter, bool follow, TimeProvider time)
    {
        _file = file;
        _cutter = cutter;
        _follow = follow && !file.CanBlock && !file.IsPacked;
        _time = time;
        _totalBytes = file.RawLength ?? -1;
    }

    /// <summary>Opens a file.</summary>
    /// <param name="options">Which one, and how it is written.</param>
    /// <param name="maximumBytes">The longest record; a longer one becomes a reject without being read into memory as a whole.</param>
    /// <param name="time">By which to wait for more, where the file is followed.</param>
    /// <exception cref="InvalidRecordingException">There is no such file, or it cannot be opened.</exception>
    public static FileSource Open(FileSourceOptions options, int maximumBytes, TimeProvider time) =>
        Open(RecordingFile.Open(options.Path), options, maximumBytes, time);

    /// <summary>Takes the bytes of a file that is open.</summary>
    internal static FileSource Open(RecordingFile file, FileSourceOptions options, int maximumBytes, TimeProvider time)
    {
        IRecordCutter cutter = options.Format switch
        {
            RecordingFormat.JsonLines => new LineCutter(maximumBytes),
            RecordingFormat.Csv => new CsvCutter(options.Path, maximumBytes),
            // Rows of Parquet are no bytes in a row: RecordingSource gives them to a source of their own.
            _ => throw new ArgumentOutOfRangeException(nameof(options), options.Format, null),
        };
        return new FileSource(file, cutter, options.Follow, time);
    }

    /// <inheritdoc/>
    public SourcePosition Position => _longLineStart ?? PositionHere();

    /// <inheritdoc/>
    public SourceProgress Progress =>
        new(Volatile.Read(ref _bytesRead), Volatile.Read(ref _totalBytes) is >= 0 and long total ? total : null);

    /// <inheritdoc/>
    /// <remarks>A pipe cannot be read twice: there it goes on with the first byte that comes.</remarks>
    public void Seek(SourcePosition position)
    {
        if (_file.CanBlock || position.Origins is not [{ Number: > 0 } origin]) return;
        try
        {
            if (_cutter.NeedsHeader)
            {
                // By a handle of its own, so that this one need not go back.
                using var beginning = new FileSource(RecordingFile.Open(_file.Path), _cutter, follow: false, _time);
                while (!beginning.TakeHeader()) beginning.Read();
            }
            SeekTo(origin);
        }
        catch (Exception e) when (IsUnreadable(e))
        {
            throw CannotRead(e);
        }
    }

    /// <inheritdoc/>
    public async ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        batch.Origin = _file.Origin;
        while (!cancellation.IsCancellationRequested)
        {
            Cut(batch, maximumRecords);
            if (batch.Count > 0) return FillOutcome.Filled;
            if (_atEnd) return FillOutcome.Ended;
            try
            {
                if (!_file.CanBlock) Read();
                else if (!await ReadPipeAsync(cancellation).ConfigureAwait(false)) return FillOutcome.Idle;
            }
            catch (Exception e) when (IsUnreadable(e))
            {
                throw CannotRead(e);
            }
            if (!_atEnd || !_follow) continue;
            _atEnd = false;
            CheckLength();
            await WaitAsync(cancellation).ConfigureAwait(false);
            return FillOutcome.Idle;
        }
        return FillOutcome.Idle;
    }

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private void Cut(RecordBatch batch, int maximumRecords)
    {
        if (!TakeHeader()) return;
        while (batch.Count < maximumRecords)
        {
            int before = batch.Count;
            int taken = _cutter.Cut(_window.Unread, _atEnd, batch);
            if (taken == 0 && batch.Count == before) return;
            // A commit within a line that is passed over must lead back to its beginning.
            _longLineStart = _cutter.IsWithinRecord ? _longLineStart ?? PositionHere() : null;
            _window.Take(taken);
        }
    }

    /// <summary>Takes what stands before the first record; false when more must be read first.</summary>
    private bool TakeHeader()
    {
        if (_isBegun) return true;
        bool isBegun = _isResumed ? TakeLineEnd() : TakeByteOrderMark();
        if (isBegun && _cutter.NeedsHeader)
        {
            int taken = _cutter.CutHeader(_window.Unread, _atEnd);
            _window.Take(taken);
            isBegun = taken > 0;
        }
        return _isBegun = isBegun;
    }

    private bool TakeByteOrderMark()
    {
        var mark = "\uFEFF"u8;
        var unread = _window.Unread;
        if (_window.Offset > 0) return true;
        if (unread.Length < mark.Length && mark.StartsWith(unread)) return _atEnd;
        if (unread.StartsWith(mark)) _window.Take(mark.Length);
        return true;
    }

    /// <summary>
    /// Takes the rest of the line before. The last line of a file may have been taken without a line end, which came only when the
    /// file grew.
    /// </summary>
    private bool TakeLineEnd()
    {
        var unread = _window.Unread;
        if (_window.Taken[^1] == '\n') return true;
        if (unread.Length < 2 && "\r\n"u8.StartsWith(unread)) return _atEnd;
        if (unread[0] == '\n') _window.Take(1);
        else if (unread.StartsWith("\r\n"u8)) _window.Take(2);
        return true;
    }

    private void Read() => Add(_file.Content.Read(_window.MakeRoom().Span));

    /// <summary>Reads from a pipe; false when nothing came for a while. Then the read goes on, and its bytes come later.</summary>
    private async ValueTask<bool> ReadPipeAsync(CancellationToken cancellation)
    {
        _pendingRead ??= _file.Content.ReadAsync(_window.MakeRoom(), CancellationToken.None).AsTask();
        if (!_pendingRead.IsCompleted)
            await Task.WhenAny(_pendingRead, WaitAsync(cancellation)).ConfigureAwait(false);
        if (!_pendingRead.IsCompleted) return false;
        int read = await _pendingRead.ConfigureAwait(false);
        _pendingRead = null;
        Add(read);
        return true;
    }

    private void Add(int read)
    {
        _window.Add(read);
        _atEnd = read == 0;
        Volatile.Write(ref _bytesRead, _file.RawBytesRead ?? _bytesRead + read);
    }

    private void CheckLength()
    {
        if (_file.RawLength is not long length) return;
        Volatile.Write(ref _totalBytes, length);
        if (length < _file.RawBytesRead)
            throw new PipelineException($"{_file.Path} became shorter while it was read: {length} bytes are left of {_file.RawBytesRead}.");
    }

    private async Task WaitAsync(CancellationToken cancellation) =>
        await Task.Delay(IdleWait, _time, cancellation).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);

    private SourcePosition PositionHere() => _file.CanBlock
        ? SourcePosition.Start
        : new SourcePosition([new OriginPosition(_file.Origin, _window.Offset, _cutter.Line, _window.Fingerprint)]);

    private void SeekTo(OriginPosition origin)
    {
        Span<byte> before = stackalloc byte[(int)Math.Min(origin.Offset, ReadWindow.FingerprintBytes)];
        bool isThere = _file.TrySkipTo(origin.Offset - before.Length)
            && _file.Content.ReadAtLeast(before, before.Length, throwOnEndOfStream: false) == before.Length;
        if (!isThere)
            throw new PipelineException(
                $"{_file.Path} has fewer than the {origin.Offset} bytes that were read of it before. "
                + "Put the whole file back, or begin with a new state folder.");
        _window.MoveTo(origin.Offset, before);
        if (_window.Fingerprint != origin.Fingerprint)
            throw new PipelineException(
                $"{_file.Path} is another file than the one that was read before: the bytes before byte {origin.Offset} differ. "
                + "Put the old file back, or begin with a new state folder.");
        _cutter.Line = origin.Number;
        _isResumed = true;
        Volatile.Write(ref _bytesRead, _file.RawBytesRead ?? origin.Offset);
    }

    // What unpacks the bytes has exceptions of its own for bytes that are damaged.
    private static bool IsUnreadable(Exception cause) => cause is IOException or InvalidDataException or ZstdException;

    private PipelineException CannotRead(Exception cause) => new($"{_file.Path} cannot be read: {cause.Message}", cause);
}
