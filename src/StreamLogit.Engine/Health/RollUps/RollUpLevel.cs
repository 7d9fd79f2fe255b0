using System.Runtime.InteropServices;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.RollUps;

/// <summary>The buckets of one length: the open one, which is added to, and the last closed ones, empty ones left out.</summary>
internal sealed class RollUpLevel
{
    private readonly RollUpRetention _retention;
    private readonly int _width;
    private readonly long[] _bucketNumbers;
    private readonly double[] _closedNumbers;
    private readonly bool[] _isDirty;
    private readonly long[] _revisions;
    private readonly PackedTallies _tallies;

    public RollUpLevel(RollUpRetention retention, int numbers, int cells, int width, int cellsPerTallyAtFirst)
    {
        _retention = retention;
        _width = width;
        Numbers = new double[numbers];
        Tally = new Tally(cells, width);
        _bucketNumbers = new long[retention.Buckets];
        _closedNumbers = new double[retention.Buckets * numbers];
        _isDirty = new bool[retention.Buckets];
        _revisions = new long[retention.Buckets];
        _tallies = new PackedTallies(retention.Tallies, width, retention.Tallies * cellsPerTallyAtFirst);
    }

    public int Minutes => _retention.Minutes;

    public int TalliesKept => _retention.Tallies;

    public int BucketsKept => _retention.Buckets;

    /// <summary>The numbers of the open bucket.</summary>
    public double[] Numbers { get; }

    /// <summary>The tally of the open bucket.</summary>
    public Tally Tally { get; }

    /// <summary>The number of the open bucket: its start in minutes since 1970 over its length.</summary>
    public long OpenBucket { get; private set; }

    /// <summary>Buckets ever closed.</summary>
    public long Closed { get; private set; }

    /// <summary>The first closed bucket that is still kept.</summary>
    public long FirstKept => Math.Max(0, Closed - _retention.Buckets);

    public bool IsOpenEmpty => Tally.IsEmpty && !Numbers.AsSpan().ContainsAnyExcept(0.0);

    /// <summary>The number of a closed bucket that is kept.</summary>
    public long BucketNumber(long closed) => _bucketNumbers[closed % _retention.Buckets];

    /// <summary>The numbers of a closed bucket that is kept.</summary>
    public Span<double> NumbersOf(long closed) => _closedNumbers.AsSpan((int)(closed % _retention.Buckets) * Numbers.Length, Numbers.Length);

    public void AddTallyOf(long closed, Tally target) => _tallies.AddTo(closed, target);

    public Span<double> FindCell(long closed, int cell) => _tallies.Find(closed, cell);

    /// <summary>A number that changes when the bucket in this place does.</summary>
    public long RevisionOf(long closed) => _revisions[closed % _retention.Buckets];

    public void MarkChanged(long closed)
    {
        int place = (int)(closed % _retention.Buckets);
        _isDirty[place] = true;
        _revisions[place]++;
    }

    public void OpenNext(long bucket)
    {
        OpenBucket = bucket;
        Numbers.AsSpan().Clear();
        Tally.Clear();
    }

    /// <summary>Keeps the open bucket as the newest closed one. It stays open until <see cref="OpenNext"/>.</summary>
    public void Close()
    {
        int place = (int)(Closed % _retention.Buckets);
        _bucketNumbers[place] = OpenBucket;
        Numbers.CopyTo(_closedNumbers.AsSpan(place * Numbers.Length));
        MarkChanged(Closed);
        _tallies.Add(Tally);
        Closed++;
    }

    /// <summary>The first closed bucket, in order, whose number is at least <paramref name="bucket"/>.</summary>
    public long FirstFrom(long bucket)
    {
        long low = FirstKept, high = Closed;
        while (low < high)
        {
            long middle = (low + high) / 2;
            if (BucketNumber(middle) < bucket) low = middle + 1;
            else high = middle;
        }
        return low;
    }

    public void Save(string part, StateBlocks changes)
    {
        for (long closed = FirstKept; closed < Closed; closed++)
        {
            int place = (int)(closed % _retention.Buckets);
            if (!_isDirty[place]) continue;
            _isDirty[place] = false;
            using var bytes = new MemoryStream();
            using var writer = new BinaryWriter(bytes);
            writer.Write(_bucketNumbers[place]);
            writer.Write(MemoryMarshal.AsBytes(NumbersOf(closed)));
            _tallies.Save(closed, writer);
            changes.Put(part, place, bytes.ToArray());
        }
    }

    /// <summary>Takes up closed buckets in their order, which may come from a ring of another length.</summary>
    public void Load(string part, StateBlocks state, ReadOnlySpan<int> places, ISet<long> obsolete)
    {
        var buckets = state.Read(part).Select(block => (Bucket: MemoryMarshal.Read<long>(block.Bytes), block.Number, block.Bytes)).OrderBy(b => b.Bucket).ToList();
        foreach (var (bucket, number, bytes) in buckets)
        {
            if (number >= _retention.Buckets) obsolete.Add(number);
            using var reader = new BinaryReader(new MemoryStream(bytes));
            OpenNext(reader.ReadInt64());
            NumberRow.Read(reader, Numbers, places);
            Tally.Load(reader);
            Close();
        }
    }
}
