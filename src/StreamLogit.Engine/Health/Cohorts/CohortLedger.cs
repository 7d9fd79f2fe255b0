using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>
/// Counts labels at the time at which their events were scored: in the hour, and in the day where that hour is not kept any more. An hour that falls out of what is kept is
/// added to its day.
/// </summary>
/// <param name="history">How many hours and days are kept.</param>
internal sealed class CohortLedger(HealthHistoryOptions history)
{
    private const long MicrosecondsOfHour = 3_600_000_000;
    private const long HoursOfDay = 24;

    // The ages that are told apart, in hours.
    private static readonly ImmutableArray<long> AgeEdges = [0, 1, 3, 6, 12, 24, 48, 72, 168, 336, 720, 1440, 2160, 4320, 8760, long.MaxValue / MicrosecondsOfHour];

    private readonly CohortRing _hours = new("health/cohorts/hours", history.Hours);
    private readonly CohortRing _days = new("health/cohorts/days", history.Days);

    /// <summary>Moves to an hour, counted from 1970, that is not before the present one.</summary>
    public void MoveTo(long hour)
    {
        if (hour == _hours.Open) return;
        if (DayOf(hour) != _days.Open) _days.MoveTo(DayOf(hour));
        long last = Math.Min(_hours.Open, hour - history.Hours);
        for (long old = _hours.First; old <= last; old++) Retire(old, _hours[old]);
        _hours.MoveTo(hour);
    }

    /// <summary>Counts events that were scored in the present hour.</summary>
    public void CountEvents(double events)
    {
        if (_hours.TryUse(_hours.Open, out int hour)) _hours.At(hour).Events += events;
    }

    /// <summary>Counts labels.</summary>
    public void CountLabels(LabelRun run)
    {
        var scoredAt = run.ScoredAt;
        for (int i = 0; i < scoredAt.Length;)
        {
            // Labels of the same hour often come together.
            long hour = HourOf(scoredAt[i]), start = hour * MicrosecondsOfHour;
            int end = i + 1;
            while (end < scoredAt.Length && (ulong)(scoredAt[end] - start) < MicrosecondsOfHour) end++;
            if (_hours.TryUse(hour, out int place)) run.AddTo(i, end, ref _hours.At(place));
            else if (_days.TryUse(DayOf(hour), out place)) run.AddTo(i, end, ref _days.At(place));
            i = end;
        }
    }

    /// <summary>Adds what a corrected label changes, or an assumed one that turned out to be true.</summary>
    public void Change(long scoredAtMicroseconds, in CohortSums change)
    {
        long hour = HourOf(scoredAtMicroseconds);
        if (_hours.TryUse(hour, out int place)) Add(ref _hours.At(place), change);
        else Retire(hour, change);
    }

    /// <summary>The figures of now.</summary>
    /// <param name="clockMicroseconds">The stream's clock.</param>
    /// <param name="openEvents">Events of the present hour that are not counted yet.</param>
    public CohortFigures Figures(long clockMicroseconds, double openEvents)
    {
        var hours = ImmutableArray.CreateBuilder<EventCohort>();
        var days = ImmutableArray.CreateBuilder<EventCohort>();
        long hour = _hours.First;
        for (long day = _days.First; day <= _days.Open; day++)
        {
            var sums = _days[day];
            for (; hour <= _hours.Open && DayOf(hour) <= day; hour++)
            {
                var ofHour = _hours[hour];
                if (hour == _hours.Open) ofHour.Events += openEvents;
                if (!ofHour.IsEmpty) hours.Add(Cohort(hour, MicrosecondsOfHour, ofHour));
                if (DayOf(hour) == day) Add(ref sums, ofHour);
            }
            if (!sums.IsEmpty) days.Add(Cohort(day, HoursOfDay * MicrosecondsOfHour, sums));
        }
        var (allHours, allDays) = (hours.DrainToImmutable(), days.DrainToImmutable());
        return new CohortFigures(allHours, allDays, ByAge(allHours, allDays, clockMicroseconds));
    }

    public void Save(StateBlocks changes)
    {
        _hours.Save(changes);
        _days.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        _days.Load(state, dropped: null);
        _hours.Load(state, Retire);
    }

    private void Retire(long hour, CohortSums sums)
    {
        if (_days.TryUse(DayOf(hour), out int place)) Add(ref _days.At(place), sums);
    }

    private static EventCohort Cohort(long number, long length, in CohortSums sums) => new(
        number * length, length, (long)sums.Events, sums.Labelled, sums.Weight, sums.LogLoss / sums.Weight, sums.BaseRateLogLoss / sums.Weight,
        sums.Probability / sums.Weight, sums.Positive / sums.Weight);

    private static ImmutableArray<LabelledAtAge> ByAge(ImmutableArray<EventCohort> hours, ImmutableArray<EventCohort> days, long clock)
    {
        var events = new long[AgeEdges.Length - 1];
        var labelled = new double[AgeEdges.Length - 1];
        foreach (var cohort in hours) Count(cohort);
        // Whole days before the first hour that is kept.
        long firstHour = hours.IsEmpty ? long.MaxValue : hours[0].FromMicroseconds;
        foreach (var cohort in days)
            if (cohort.FromMicroseconds + cohort.LengthMicroseconds <= firstHour) Count(cohort);

        var ages = ImmutableArray.CreateBuilder<LabelledAtAge>();
        for (int i = 0; i < events.Length; i++)
            if (events[i] > 0) ages.Add(new LabelledAtAge(AgeEdges[i] * MicrosecondsOfHour, AgeEdges[i + 1] * MicrosecondsOfHour, events[i], labelled[i]));
        return ages.DrainToImmutable();

        void Count(in EventCohort cohort)
        {
            long age = Math.Max(clock - (cohort.FromMicroseconds + cohort.LengthMicroseconds / 2), 0) / MicrosecondsOfHour;
            int band = 0;
            while (age >= AgeEdges[band + 1]) band++;
            events[band] += cohort.Events;
            labelled[band] += cohort.Labelled;
        }
    }

    private static void Add(ref CohortSums sums, in CohortSums change)
    {
        sums.Events += change.Events;
        sums.Labelled += change.Labelled;
        sums.Weight += change.Weight;
        sums.LogLoss += change.LogLoss;
        sums.BaseRateLogLoss += change.BaseRateLogLoss;
        sums.Probability += change.Probability;
        sums.Positive += change.Positive;
    }

    private static long DayOf(long hour) => WholeDivision.Floor(hour, HoursOfDay);

    private static long HourOf(long microseconds) => WholeDivision.Floor(microseconds, MicrosecondsOfHour);
}
