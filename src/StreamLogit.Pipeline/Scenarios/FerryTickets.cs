using System.Globalization;
using System.Text.Json;
using MathNet.Numerics.Distributions;
using MathNet.Numerics.Random;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>
/// Card payments for ferry tickets. Whether a card is stolen is drawn from a logistic model in the fields, plus how often the card was
/// used in the last day. Midway, thieves find out that small foot-passenger tickets in the app are not looked at for cards of one country.
/// </summary>
internal sealed class FerryTickets : IScenario
{
    /// <summary>As on a small line, so that a stream of 20,000 records lasts longer than its labels take.</summary>
    public const int DefaultEventsPerDay = 100;

    private const int RecentCards = 16;
    private const double RecentCardShare = 0.06;
    private const double GiftShare = 0.03;

    // The country codes are among those that ISO 3166 never assigns.
    private static readonly WeightedChoice Countries = new(
        ("QX", 0.60, -1.5), ("QY", 0.17, -1.0), ("QZ", 0.10, 0), ("QW", 0.06, -0.5), ("QV", 0.05, 3.2), ("QT", 0.02, 4.4));
    private static readonly WeightedChoice Channels = new(
        ("app", 0.42, -0.6), ("web", 0.30, 1.2), ("kiosk", 0.16, -1.5), ("counter", 0.08, -2.5), ("phone", 0.04, 2.4));
    private static readonly WeightedChoice Vehicles = new(("none", 0.72, 0), ("car", 0.22, -0.8), ("van", 0.06, 0.9));
    private static readonly WeightedChoice Routes = new(
        ("quay-skerry", 0.34, 0), ("quay-longholm", 0.24, -0.2), ("skerry-longholm", 0.12, -0.6), ("quay-farness", 0.18, 0.3), ("night-mainland", 0.12, 0.9));
    private static readonly double[] RoutePrices = [9.5, 16, 7, 27.5, 58];
    private static readonly double[] VehiclePrices = [0, 34, 52];
    private static readonly double[] Hours =
        [.15, .08, .05, .05, .1, .3, .7, 1.2, 1.6, 1.7, 1.6, 1.5, 1.6, 1.5, 1.4, 1.4, 1.5, 1.7, 1.8, 1.6, 1.3, 1.0, .7, .4];
    private static readonly double[] Days = [.85, .8, .85, 1.0, 1.4, 1.3, 1.05];

    private readonly Xoshiro256StarStar _random;
    private readonly ArrivalTimes _arrivals;
    private readonly int[] _recent = new int[RecentCards];
    private readonly (long Milliseconds, double Uses)[] _cards;
    private long _count;
    private bool _changed;

    private int _card, _country, _channel, _route, _vehicle, _passengers, _daysAhead;
    private bool _isGift;
    private double _price;

    public FerryTickets(int eventsPerDay, int seed)
    {
        _random = new Xoshiro256StarStar(seed, threadSafe: false);
        _arrivals = new ArrivalTimes(_random, eventsPerDay, Hours, Days);
        _cards = new (long, double)[(int)Math.Clamp(eventsPerDay * 40L, 100, 4_000_000)];
    }

    public IReadOnlyList<string> Fields { get; } = ["card", "country", "channel", "route", "vehicle", "gift", "passengers", "daysAhead", "price"];

    public double UnlabelledShare => 0.01;

    public void Change() => _changed = true;

    public ScenarioEvent Next()
    {
        long time = _arrivals.Next();
        _card = NextCard();
        // The country belongs to the card. 61 has no factor in common with 100, so that every hundred cards have all shares.
        _country = Countries.At((_card * 61L % 100 + 0.5) / 100);
        _channel = Channels.At(_random.NextDouble());
        _route = Routes.At(_random.NextDouble());
        _vehicle = Vehicles.At(_random.NextDouble());
        _passengers = Math.Min(9, 1 + Poisson.Sample(_random, 0.9));
        _isGift = _random.NextDouble() < GiftShare;
        _daysAhead = (int)Math.Min(120, Exponential.Sample(_random, 1 / 9.0));
        double fare = RoutePrices[_route] * _passengers + VehiclePrices[_vehicle];
        _price = Math.Max(1, Math.Round(fare * Math.Exp(Normal.Sample(_random, 0, 0.12)), 2));
        return new ScenarioEvent(time, Logistic(LogOdds(time)));
    }

    public long LabelDelayMilliseconds()
    {
        // Most banks answer within two weeks, the last within thirty days.
        double days = 2 + 28 * Beta.Sample(_random, 1.3, 3.2);
        return (long)(days * ScenarioCalendar.MillisecondsPerDay);
    }

    public void WriteFields(Utf8JsonWriter json)
    {
        Span<char> card = stackalloc char[16];
        card.TryWrite(CultureInfo.InvariantCulture, $"c-{_card:x6}", out int length);
        json.WriteString("card"u8, card[..length]);
        json.WriteString("country"u8, Countries.Name(_country));
        json.WriteString("channel"u8, Channels.Name(_channel));
        json.WriteString("route"u8, Routes.Name(_route));
        json.WriteString("vehicle"u8, Vehicles.Name(_vehicle));
        json.WriteBoolean("gift"u8, _isGift);
        json.WriteNumber("passengers"u8, _passengers);
        json.WriteNumber("daysAhead"u8, _daysAhead);
        json.WriteNumber("price"u8, _price);
    }

    public void WriteLabel(Utf8JsonWriter json, bool isBad) => json.WriteStringValue(isBad ? "stolen"u8 : "paid"u8);

    private double LogOdds(long time)
    {
        double logOdds = -7.25
            + Countries.LogOdds(_country) + Channels.LogOdds(_channel) + Routes.LogOdds(_route) + Vehicles.LogOdds(_vehicle)
            + 1.2 * (Math.Log(1 + _price) - 3.4)
            - 1.0 * (Math.Log(1 + _daysAhead) - 1.9)
            - 0.4 * (_passengers - 2)
            + 1.0 * ScenarioCalendar.DailyCosine(time, 3)
            + 0.9 * UsesInTheLastDay(time);
        return _isGift && _changed ? logOdds + 6 : logOdds;
    }

    /// <summary>Counts this use of the card and gives the uses before it, each halved for every 12 hours that have passed; at most 4.</summary>
    private double UsesInTheLastDay(long time)
    {
        ref var card = ref _cards[_card];
        double halves = (time - card.Milliseconds) / (12.0 * ScenarioCalendar.MillisecondsPerHour);
        double uses = card.Uses * Math.Pow(0.5, halves);
        card = (time, uses + 1);
        return Math.Min(4, uses);
    }

    private int NextCard()
    {
        bool isRecent = _random.NextDouble() < RecentCardShare && _count >= RecentCards;
        double position = _random.NextDouble();
        // The square makes some cards regulars and most of them rare.
        int card = isRecent ? _recent[(int)(position * RecentCards)] : (int)(position * position * _cards.Length);
        _recent[_count++ % RecentCards] = card;
        return card;
    }

    private static double Logistic(double logOdds) => 1 / (1 + Math.Exp(-logOdds));
}
