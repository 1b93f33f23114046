from governance.bylaws import words


def test_a_day_of_the_year_is_read_with_its_month():
    assert words.day_of_year((4, 10)) == "10 April"
    assert words.day_of_year((12, 31)) == "31 December"
