"""The commons and what it governs; the dated facts about its members."""

from django.db import models

from ledger.foundation.appendonly import AppendOnlyModel


class Commons(models.Model):
    """An association that keeps a book; ``is_demo`` marks one made by the demo alone."""

    slug = models.SlugField(max_length=60)
    name = models.CharField(max_length=200)
    zone = models.CharField(max_length=60)
    money = models.CharField(max_length=3)
    is_demo = models.BooleanField(default=False)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["slug"], name="commons_slug_once")]


class Resource(models.Model):
    """What is drawn on; its base unit never changes."""

    commons = models.ForeignKey(Commons, on_delete=models.PROTECT, related_name="resources")
    code = models.SlugField(max_length=40)
    name = models.CharField(max_length=120)
    unit = models.CharField(max_length=20)
    base = models.CharField(max_length=20)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["commons", "code"], name="resource_code_once"),
        ]


class Zone(models.Model):
    """A part of a resource."""

    commons = models.ForeignKey(Commons, on_delete=models.PROTECT, related_name="zones")
    resource = models.ForeignKey(Resource, on_delete=models.PROTECT)
    code = models.SlugField(max_length=40)
    name = models.CharField(max_length=120)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["commons", "code"], name="zone_code_once")]


class Member(models.Model):
    """A member: the number that the journal knows, and the name, which it never holds."""

    commons = models.ForeignKey(Commons, on_delete=models.PROTECT, related_name="members")
    number = models.PositiveIntegerField()
    name = models.CharField(max_length=200)
    household = models.PositiveIntegerField()
    draw_point = models.CharField(max_length=120)
    entry_number = models.BigIntegerField()

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["commons", "number"], name="member_number_once"),
            # 0 stands for the book itself, where no person acts.
            models.CheckConstraint(
                condition=models.Q(number__gte=1), name="member_number_from_one"
            ),
        ]


class DatedRow(AppendOnlyModel):
    """A fact that holds on some days; the entry that says so; never rewritten."""

    commons = models.ForeignKey(Commons, on_delete=models.PROTECT, related_name="+")
    first_day = models.DateField()
    until_day = models.DateField()
    entry_number = models.BigIntegerField()

    class Meta(AppendOnlyModel.Meta):
        abstract = True
        constraints = [
            models.CheckConstraint(
                condition=models.Q(until_day__gt=models.F("first_day")),
                name="%(class)s_holds_a_day",
            ),
        ]


class MemberClass(DatedRow):
    """The class that a member belongs to."""

    member = models.PositiveIntegerField()
    value = models.CharField(max_length=40)


class Share(DatedRow):
    """The measure of a member's right in a resource, as a fraction."""

    member = models.PositiveIntegerField()
    resource = models.CharField(max_length=40)
    numerator = models.BigIntegerField()
    denominator = models.BigIntegerField()

    class Meta(DatedRow.Meta):
        constraints = [
            *DatedRow.Meta.constraints,
            models.CheckConstraint(
                condition=models.Q(numerator__gt=0, denominator__gt=0), name="share_is_positive"
            ),
        ]


class RoleHeld(DatedRow):
    """An office that a member holds."""

    member = models.PositiveIntegerField()
    role = models.CharField(max_length=20)


class Suspension(DatedRow):
    """Days on which a member may not take; ``clause`` is the ladder that ordered it."""

    member = models.PositiveIntegerField()
    clause = models.CharField(max_length=80)


class OutsideOrder(DatedRow):
    """A command of an outside authority that closes zones of a resource.

    Its notice stands among the texts of its entry, from which it can be erased.
    """

    authority = models.CharField(max_length=200)
    resource = models.CharField(max_length=40)
    zones = models.JSONField()
